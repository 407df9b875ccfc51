import { mount } from 'svelte';
import App from './App.svelte';
import { connect } from './backend/connect';
import './app.css';

const room = document.getElementById('window');
if (room) {
  connect().then(
    (backend) => mount(App, { target: room, props: { backend } }),
    (reason: unknown) => {
      room.textContent = reason instanceof Error ? reason.message : String(reason);
    },
  );
}
